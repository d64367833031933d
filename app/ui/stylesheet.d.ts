// Stylesheets are imported for their effect alone.
declare module "*.css";
