"use client";
import { signOut } from "next-auth/react";
import { useState } from "react";
import { Button } from "../ui/button";

export function SignOut() {
  const [leaving, setLeaving] = useState(false);
  const leave = () => {
    setLeaving(true);
    void signOut({ callbackUrl: "/sign-in" });
  };
  return (
    <Button look="quiet" small busy={leaving} onClick={leave} className="px-0">
      Sign out
    </Button>
  );
}
