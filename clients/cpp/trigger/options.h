// Flags of the form --name value.
#pragma once

#include <map>
#include <string>

namespace kinegate::trigger {

// Options are the flags of a program.
class Options {
 public:
  // known are the flags there are, with their defaults. Throws Error at any other.
  Options(int argc, char** argv, std::map<std::string, std::string> known);

  // text returns a flag.
  const std::string& text(const std::string& name) const { return values_.at(name); }
  // number returns a flag that must be a number above 0. Throws Error that names flag and value.
  double number(const std::string& name) const;

 private:
  std::map<std::string, std::string> values_;
};

}  // namespace kinegate::trigger
