// SPDX-License-Identifier: GPL-3.0-or-later
#include "app/window/window.hpp"

#include <QApplication>

#include "app/window/main_window.hpp"

namespace binwright {

int open_window(int& argc, char** argv, const WindowStart& start) {
    QApplication application(argc, argv);
    QApplication::setApplicationName("binwright");
    QApplication::setOrganizationName("binwright");
    QApplication::setApplicationDisplayName("Binwright");
    MainWindow window(start, dialogs());
    window.show();
    return QApplication::exec();
}

}  // namespace binwright
