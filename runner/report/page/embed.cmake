# Makes the source that holds what every page of a report holds: html_assets.hpp.
#   cmake -D PAGE=<this folder> -D LIBRARY=<dygraph.min.js> -D LIBRARY_STYLE=<dygraph.min.css>
#         -D COPYRIGHT=<of the package> -D OUT=<file> -P embed.cmake
# Of the library's files the references to maps are dropped: a browser would look for them beside the page.

function(bytes_of text result)
    string(HEX "${text}" hex)
    string(REGEX REPLACE "([0-9a-f][0-9a-f])" "0x\\1," hex "${hex}")
    string(REGEX REPLACE "(0x..,0x..,0x..,0x..,0x..,0x..,0x..,0x..,0x..,0x..,0x..,0x..,0x..,0x..,0x..,0x..,)" "\\1\n" hex "${hex}")
    set(${result} "${hex}" PARENT_SCOPE)
endfunction()

set(source "// Made by runner/report/page/embed.cmake.\n#include \"runner/report/html_assets.hpp\"\n\nnamespace halflsb {\n\n")
function(add_text function text)
    bytes_of("${text}" bytes)
    # Terminated by a zero, so that an empty text is an array too.
    string(APPEND source "std::string_view ${function}() {\n    static constexpr unsigned char bytes[] = {\n${bytes}0x00};\n"
                         "    return {reinterpret_cast<const char*>(bytes), sizeof bytes - 1};\n}\n\n")
    set(source "${source}" PARENT_SCOPE)
endfunction()

file(READ ${PAGE}/page.css style)
file(READ ${LIBRARY_STYLE} library_style)
file(READ ${PAGE}/page.js script)
file(READ ${PAGE}/words.html words)
file(READ ${LIBRARY} library)
file(READ ${COPYRIGHT} copyright)
string(REGEX REPLACE "/[*]# sourceMappingURL=[^*]*[*]/" "" library_style "${library_style}")
string(REGEX REPLACE "//# sourceMappingURL=[^\n]*" "" library "${library}")
foreach(text style library_style script library)
    if("${${text}}" MATCHES "</(script|style)|sourceMappingURL|<!--")
        message(FATAL_ERROR "${text} would end its element, or names another file")
    endif()
endforeach()
add_text(report_style "${library_style}\n${style}")
add_text(report_script "${script}")
add_text(report_words "${words}")
add_text(plot_library "${library}")
add_text(plot_copyright "${copyright}")
file(WRITE ${OUT} "${source}}  // namespace halflsb\n")
