import { SignInScreen } from '../components/auth/sign-in-screen.tsx';

export default SignInScreen;
