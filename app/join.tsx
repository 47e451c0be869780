import { JoinScreen } from '../components/auth/join-screen.tsx';

export default JoinScreen;
