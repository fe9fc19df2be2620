#include "oracle/filters/c_array.hpp"

#include <algorithm>

#include "oracle/filters/c_initialiser.hpp"

namespace halflsb {

namespace {

constexpr std::size_t most_names_shown = 6;

FileProblem refused(std::size_t at, std::string problem, std::string_view remedy) {
    return {at, {}, std::move(problem), std::string(remedy)};
}

std::string names_of(const std::vector<CDeclaration>& declarations) {
    std::string text;
    std::size_t count = 0;
    for (const CDeclaration& declaration : declarations) {
        if (!declaration.is_array) continue;
        if (++count > most_names_shown) return text + " and more";
        text += (text.empty() ? "" : ", ") + std::string(declaration.name.text.substr(0, 60));
    }
    return text;
}

FileProblem about_plan(std::string_view word, std::string problem, std::string remedy) {
    return {std::nullopt, std::string(word), std::move(problem), std::move(remedy)};
}

/// Numbers between commas and nothing else.
bool is_bare_list(const CSource& source) {
    const CToken& first = source.tokens.front();
    return first.kind == CToken::Kind::number || first.is("-") || first.is("+") || first.is("(") || first.is("{");
}

}  // namespace

ReadTable read_c_array(std::string_view text, const CArrayWish& wish) {
    const auto read = read_c_tokens(text);
    if (const auto* problem = std::get_if<FileProblem>(&read)) return *problem;
    const CSource& source = std::get<CSource>(read);
    const std::vector<CDeclaration> all = c_declarations(source);
    const auto arrays = std::count_if(all.begin(), all.end(), [](const CDeclaration& d) { return d.is_array; });
    if (wish.name.empty()) {
        if (arrays == 0 && is_bare_list(source)) {
            return read_bare_c_list(source, wish);
        }
        if (arrays == 0) {
            return refused(0, "there is no array with numbers in the file",
                           "name the file that holds the numbers: a header may only declare the array");
        }
        if (arrays > 1) {
            const auto is_array = [](const CDeclaration& d) { return d.is_array; };
            const std::string first(std::find_if(all.begin(), all.end(), is_array)->name.text.substr(0, 60));
            return about_plan("", "the file holds " + std::to_string(arrays) + " arrays: " + names_of(all),
                              "choose one, for example file_array = \"" + first + "\"");
        }
    }
    const CDeclaration* chosen = nullptr;
    for (const CDeclaration& declaration : all) {
        if (wish.name.empty() ? !declaration.is_array : declaration.name.text != wish.name) continue;
        if (chosen != nullptr) {
            return refused(declaration.name.at, "a second array is called " + quoted_from_file(wish.name),
                           "which one is compiled cannot be seen here: put the firmware's own into a file of its own");
        }
        chosen = &declaration;
    }
    if (chosen == nullptr) {
        return about_plan("file_array", "file_array = " + quoted_from_file(wish.name) + ": the file has no such array",
                          arrays == 0 ? std::string("it has none with numbers")
                                      : (arrays == 1 ? "its array is " : "its arrays are ") + names_of(all));
    }
    return read_c_initialiser(source, *chosen, wish);
}

}  // namespace halflsb
