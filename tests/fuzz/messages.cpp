// Each message body of docs/wire.md: what decodes, encodes to the same bytes again.
#include "runner/wire/messages.hpp"

#include <algorithm>

#include "tests/fuzz/target.hpp"

using namespace halflsb;

namespace {

template <class Message>
void check(message::BytesView body) {
    const auto decoded = message::decode<Message>(body);
    if (!decoded) return;
    message::Bytes again;
    message::encode(*decoded, again);
    fuzz::require(std::equal(again.begin(), again.end(), body.begin(), body.end()), "encode(decode(body)) = body");
}

}  // namespace

extern "C" int LLVMFuzzerTestOneInput(const std::uint8_t* data, std::size_t size) {
    const message::BytesView body = fuzz::bytes_of(data, size);
    check<message::Hello>(body);
    check<message::Start>(body);
    check<message::Status>(body);
    check<message::Echo>(body);
    check<message::Samples>(body);
    check<message::Reset>(body);
    check<message::Set>(body);
    check<message::Load>(body);
    check<message::Select>(body);
    check<message::GreetingPage>(body);
    check<message::BoardPage>(body);
    check<message::FilterPage>(body);
    check<message::SettingPage>(body);
    check<message::Started>(body);
    check<message::Counters>(body);
    check<message::Response>(body);
    check<message::Done>(body);
    check<message::Expect>(body);
    check<message::Refused>(body);
    if (size > 0) {
        fuzz::require(!message::name_of(data[0]).empty(), "each type has a name");
        fuzz::require(!message::reason_text(data[0]).empty(), "each reason has a text");
    }
    return 0;
}
