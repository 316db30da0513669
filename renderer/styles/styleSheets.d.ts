/** Style sheets are taken in for their effect; the bundler makes files of them. */
declare module '*.css';
