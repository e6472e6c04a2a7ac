export const AddSky = () => null
