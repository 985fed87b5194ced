# expect: no-reaction file
substrate glucose
