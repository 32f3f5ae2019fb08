export const nullIds = ['labels', 'trial-order', 'time-shift'] as const;
