import '../constants/theme.css';
import '../constants/base.css';
import '../components/ui/kit.css';
import '../components/shell/shell.css';
import { AppRoot } from '../components/shell/app-root.tsx';
import { registerFonts } from '../lib/theme/font-faces.ts';
import { applyTheme } from '../lib/theme/theme-choice.ts';

applyTheme();
registerFonts();

export default AppRoot;
