#include "runner/config/document.hpp"

#include "runner/world/printable.hpp"

namespace halflsb {

std::variant<Document, ReadProblems> open_document(const std::string& path, const Files& files, std::string_view page) {
    auto bytes = files.read(path, largest_config_bytes);
    if (!bytes)
        return ReadProblems{{render_without_line(path, printable(bytes.error().problem), bytes.error().remedy)}};
    SourceText source(path, *bytes);
    auto tree = parse_document(source, page);
    if (auto* problem = std::get_if<std::string>(&tree)) return ReadProblems{{std::move(*problem)}};
    return Document{std::move(source), std::get<TomlValue>(std::move(tree)), std::move(*bytes)};
}

std::variant<TomlValue, std::string> parse_document(const SourceText& source, std::string_view page, int source_index) {
    if (source.bytes().find_first_not_of(" \t\r\n") == std::string::npos)
        return source.render({1, 1}, "the file is empty", std::string(page) + " shows what belongs in it");
    if (auto problem = source.not_text()) return std::move(*problem);
    return parse_toml(source, source_index);
}

std::string folder_of(const std::string& path) {
    const std::size_t slash = path.rfind('/');
    if (slash == std::string::npos) return ".";
    return slash == 0 ? "/" : path.substr(0, slash);
}

}  // namespace halflsb
