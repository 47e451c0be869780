import { RoundsScreen } from '../components/rounds/rounds-screen.tsx';

export default RoundsScreen;
