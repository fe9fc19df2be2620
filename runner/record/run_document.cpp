#include "runner/record/run_document.hpp"

#include "runner/record/json_text.hpp"

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
    return whole;
}

}  // namespace halflsb
