import { route } from "@/lib/http";
import { sendTransactions } from "@/lib/transactions/send";

export const POST = route("POST /api/transactions", sendTransactions);
