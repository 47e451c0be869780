import { AccountScreen } from '../components/account/account-screen.tsx';

export default AccountScreen;
