# One image for both: the service, and with `node --import tsx server/worker.ts` a worker that judges what the service puts into Redis.

FROM node:20-bookworm-slim AS dependencies
# The SQLite binding is compiled where no ready one can be fetched.
RUN apt-get update \
  && apt-get install -y --no-install-recommends g++ make python3 \
  && rm -rf /var/lib/apt/lists/*
WORKDIR /app
COPY package.json package-lock.json ./
RUN npm ci --omit=dev --no-audit --no-fund

FROM node:20-bookworm-slim
ENV NODE_ENV=production HOLDFAST_HOST=0.0.0.0 HOLDFAST_PORT=8080 HOLDFAST_DATA=/data
WORKDIR /app
COPY --from=dependencies /app/node_modules ./node_modules
COPY package.json package-lock.json ./
COPY db ./db
COPY model ./model
COPY server ./server
COPY scripts/backup.ts scripts/restore.ts scripts/record-arguments.ts ./scripts/
RUN mkdir /data && chown node:node /data
USER node
VOLUME /data
EXPOSE 8080
HEALTHCHECK --interval=10s --timeout=5s --start-period=30s --retries=3 \
  CMD ["node", "-e", "fetch(`http://127.0.0.1:${process.env.HOLDFAST_PORT}/health/ready`).then(({ ok }) => process.exit(ok ? 0 : 1), () => process.exit(1))"]
CMD ["node", "--import", "tsx", "server/main.ts"]
