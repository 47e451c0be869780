import { NotFoundScreen } from '../components/shell/not-found-screen.tsx';

export default NotFoundScreen;
