/** What `$lib` stands for, in the one form that the dependency check reads it from. */
module.exports = { resolve: { alias: { $lib: require('node:path').resolve(__dirname, '../../src/lib') } } };
