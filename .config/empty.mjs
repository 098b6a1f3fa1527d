// Stands in for Ink's development tools, which are imported only when DEV is set and are not part of the program.
export default { initialize() {}, connectToDevTools() {} };
