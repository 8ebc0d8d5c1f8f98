export default undefined;
