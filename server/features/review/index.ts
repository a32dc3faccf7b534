export { reviewRoutes } from './routes';
export { createReviewService, type ReviewService } from './service';
