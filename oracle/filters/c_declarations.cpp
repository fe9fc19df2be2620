#include "oracle/filters/c_declarations.hpp"

#include <algorithm>

namespace halflsb {

namespace {

using Tokens = std::vector<CToken>;

/// Of the words of one type, and of what stands in brackets: beyond these nothing is a declaration of numbers. The
/// time stays proportional to the length of the file.
constexpr std::size_t most_words = 64, most_in_brackets = 256;

class Finder {
public:
    explicit Finder(const CSource& source) : source_(source), tokens_(source.tokens) {}

    std::vector<CDeclaration> find() {
        std::size_t at = 0;
        while (tokens_[at].kind != CToken::Kind::end) at = step(at);
        return std::move(found_);
    }

private:
    /// Looks at one token; gives the index to go on from.
    std::size_t step(std::size_t at) {
        const CToken& token = tokens_[at];
        const bool is_border =
            token.is(";") || token.is("{") || token.is("}") || token.is(":") || token.kind == CToken::Kind::directive;
        // std::array has its colons within a declaration.
        if (is_border && !(token.is(":") && (is_mark(at + 1, ":") || (at > 0 && is_mark(at - 1, ":"))))) {
            begin_ = at + 1;
            type_end_ = 0;
            return at + 1;
        }
        if (token.kind != CToken::Kind::name || at == begin_) return at + 1;
        CDeclaration declaration;
        declaration.name = token;
        std::size_t next = at + 1;
        if (is_mark(next, "[")) {
            while (is_mark(next, "[")) {
                const std::size_t end = closing(next, "[", "]", most_in_brackets);
                if (end == 0) return at + 1;
                declaration.sizes.emplace_back(slice(next + 1, end));
                next = end + 1;
            }
            next = behind_attributes(next);
        } else if (!is_mark(next, "=") && !(is_mark(next, "{") && is_std_array())) {
            return at + 1;
        } else {
            declaration.is_array = is_std_array();
        }
        return finished(std::move(declaration), at, next);
    }

    std::size_t finished(CDeclaration declaration, std::size_t name, std::size_t next) {
        if (is_mark(next, "=")) ++next;
        declaration.initialiser = initialiser_at(next);
        if (declaration.initialiser.tokens == nullptr) return name + 1;
        const std::size_t end_of_type = type_end_ == 0 ? name : type_end_;
        const Tokens words = slice(std::max(begin_, end_of_type - std::min(end_of_type, most_words)), end_of_type);
        if (declaration.sizes.empty() && declaration.is_array) {
            if (!take_std_array(words, declaration)) return name + 1;
        } else {
            declaration.type = words;
        }
        if (type_end_ == 0) type_end_ = name;
        found_.push_back(std::move(declaration));
        const std::size_t end = is_mark(next, "{") ? closing(next, "{", "}", tokens_.size()) : next;
        return end == 0 ? tokens_.size() - 1 : end + 1;
    }

    /// At a {, of the file itself or of a #define; without tokens where none is.
    CCursor initialiser_at(std::size_t at) const {
        if (is_mark(at, "{")) return {&tokens_, at};
        if (tokens_[at].kind != CToken::Kind::name) return {};
        const auto macro = source_.macros.find(tokens_[at].text);
        if (macro == source_.macros.end() || macro->second.size() != 1) return {};
        const CMacro& only = macro->second.front();
        const bool is_list = !only.is_function && !only.is_undefined && only.body.front().is("{");
        return is_list ? CCursor{&only.body, 0} : CCursor{};
    }

    bool is_std_array() const {
        for (std::size_t i = begin_;
             i < begin_ + most_words && (tokens_[i].kind == CToken::Kind::name || tokens_[i].is(":")); ++i) {
            if (tokens_[i].is("array") && is_mark(i + 1, "<")) return true;
        }
        return false;
    }

    /// std::array<int16_t, 4>: the type and the size.
    static bool take_std_array(const Tokens& words, CDeclaration& declaration) {
        std::size_t open = 0, comma = 0, close = 0;
        for (std::size_t i = 0; i < words.size(); ++i) {
            if (words[i].is("<") && open == 0) open = i;
            if (words[i].is(",")) comma = i;
            if (words[i].is(">")) close = i;
        }
        if (open == 0 || comma <= open || close <= comma) return false;
        const auto at = [&](std::size_t i) { return words.begin() + static_cast<std::ptrdiff_t>(i); };
        declaration.type.assign(at(open + 1), at(comma));
        declaration.sizes.emplace_back(at(comma + 1), at(close));
        declaration.is_std_array = true;
        return true;
    }

    /// PROGMEM, __attribute__((section(".ccm"))) and their like.
    std::size_t behind_attributes(std::size_t at) const {
        while (tokens_[at].kind == CToken::Kind::name) {
            ++at;
            if (!is_mark(at, "(")) continue;
            const std::size_t end = closing(at, "(", ")", most_in_brackets);
            if (end == 0) return at;
            at = end + 1;
        }
        return at;
    }

    bool is_mark(std::size_t at, std::string_view mark) const { return at < tokens_.size() && tokens_[at].is(mark); }
    Tokens slice(std::size_t begin, std::size_t end) const {
        return {tokens_.begin() + static_cast<std::ptrdiff_t>(begin),
                tokens_.begin() + static_cast<std::ptrdiff_t>(end)};
    }
    /// The index of the mark that closes the one at `at`; 0: none of the next `most` does.
    std::size_t closing(std::size_t at, std::string_view open, std::string_view close, std::size_t most) const {
        int depth = 0;
        for (const std::size_t end = std::min(tokens_.size(), at + most); at < end; ++at) {
            if (tokens_[at].is(open)) ++depth;
            if (tokens_[at].is(close) && --depth == 0) return at;
        }
        return 0;
    }

    const CSource& source_;
    const Tokens& tokens_;
    std::size_t begin_ = 0;     ///< of the declaration that one is in
    std::size_t type_end_ = 0;  ///< behind a first declarator the type is that of the first; 0: this is the first
    std::vector<CDeclaration> found_;
};

}  // namespace

std::vector<CDeclaration> c_declarations(const CSource& source) { return Finder(source).find(); }

}  // namespace halflsb
