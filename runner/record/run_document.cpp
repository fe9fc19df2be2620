#include "runner/record/run_document.hpp"

#include "runner/record/json_text.hpp"
#include "runner/world/sha256.hpp"

namespace halflsb {

void fill_last_array(std::string& document, std::string_view closing, const std::vector<std::string>& elements,
                     std::size_t level) {
    if (elements.empty()) return;
    document.resize(document.size() - closing.size() - 1);
    const std::string indent(2 * level, ' ');
    for (std::size_t i = 0; i < elements.size(); ++i) {
        document += (i == 0 ? "\n" : ",\n") + indent + elements[i];
    }
    document += "\n" + std::string(2 * (level - 1), ' ') + "]" + std::string(closing);
}

std::string joined_document(const Json& head, const std::string& verdict, const std::vector<std::string>& cases) {
    std::string whole = json_text(head);
    const std::string_view end = "\n}\n";
    whole.resize(whole.size() - end.size());
    whole += ",\n  \"verdict\": " + verdict + ",\n  \"cases\": []" + std::string(end);
    fill_last_array(whole, end, cases, run_case_level);
    return sealed(std::move(whole));
}

namespace {

/// Where the hash stands; npos without one. No string of the document can hold the key: its quotes would be escaped.
std::size_t place_of_hash(const std::string& document) {
    constexpr std::string_view key = "\"content_sha256\":";
    std::size_t at = document.find(key);
    if (at == std::string::npos) return at;
    at = document.find_first_not_of(' ', at + key.size());
    const bool is_there = at != std::string::npos && document[at] == '"' &&
                          document.size() - at > unsealed_sha256.size() + 1 &&
                          document[at + 1 + unsealed_sha256.size()] == '"';
    return is_there ? at + 1 : std::string::npos;
}

}  // namespace

std::string sealed(std::string document) {
    const std::size_t at = place_of_hash(document);
    if (at == std::string::npos) return document;
    document.replace(at, unsealed_sha256.size(), unsealed_sha256);
    return document.replace(at, unsealed_sha256.size(), sha256_of_text(document));
}

bool is_sealed(const std::string& document) {
    return place_of_hash(document) != std::string::npos && sealed(document) == document;
}

}  // namespace halflsb
