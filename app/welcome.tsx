import { WelcomeScreen } from '../components/auth/welcome-screen.tsx';

export default WelcomeScreen;
