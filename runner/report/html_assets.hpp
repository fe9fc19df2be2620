// What every page of a report holds: made at build time from runner/report/page and from the installed package of the
// plotting library (runner/report/page/embed.cmake), without their references to other files.
#pragma once

#include <string_view>

namespace halflsb {

std::string_view report_style();    ///< of the page, and of the library behind it
std::string_view report_script();   ///< page.js
std::string_view report_words();    ///< words.html: what the words of the page mean
std::string_view plot_library();    ///< the script
std::string_view plot_copyright();  ///< its licence with the notices, plain text

}  // namespace halflsb
